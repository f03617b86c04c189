//! t
use strake_oracle::cases::*;
#[test]
fn all() {
    println!("{}", run(&open_rows(), 0.0, &oracle_answer));
    println!("{}", run(&own_rows(), 0.0, &oracle_answer));
    for r in open_rows().iter().chain(&own_rows()) {
        if let Err(e) = oracle_answer(r) {
            if e.contains("understood")
                || !e.contains("topic") && !e.contains("plates") && !e.contains("substances")
            {
                println!("{} {e} {}", r.id, r.quantity());
            }
        }
    }
}
