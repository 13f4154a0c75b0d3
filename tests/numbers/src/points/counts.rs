//! Exact distributions of rank statistics, and their approximations for large samples.

use crate::table::{Table, point};
use levelwise::numerics::distributions::rank_counts;
use levelwise::numerics::distributions::rank_counts::large_samples::{self, Continuity};

pub fn add(table: &mut Table) {
    add_pairs(table);
    add_kruskal_wallis(table);
    add_large_samples(table);
}

fn add_pairs(table: &mut Table) {
    const VALUES: [f64; 8] = [0.0, 3.0, 7.5, 12.0, 40.0, 110.0, 500.0, 1000.0];
    for sizes in [&[1, 1][..], &[4, 6], &[2, 2, 2], &[5, 3, 4, 6], &[20, 25, 30], &[3; 10]] {
        for j in VALUES {
            point!(table, rank_counts::jonckheere(j, sizes));
        }
    }
    for (first, second) in [(1, 1), (4, 6), (10, 12), (40, 50)] {
        for u in VALUES {
            point!(table, rank_counts::rank_sum(u, first, second));
        }
    }
    for u in [0.0, 4.5, 12.0, 20.5] {
        point!(table, rank_counts::rank_sum_with_ties(u, 4, 6, &[3, 1, 2, 2, 1, 1]));
    }
    for j in [3.0, 14.5, 27.0, 40.0] {
        point!(table, rank_counts::jonckheere_with_ties(j, &[3, 4, 5], &[3, 1, 2, 2, 1, 1, 2]));
    }
}

fn add_large_samples(table: &mut Table) {
    for continuity in [Continuity::Uncorrected, Continuity::Half] {
        for (first, second, ties) in [(30, 40, &[][..]), (400, 300, &[100; 7]), (4, 6, &[3, 1, 2, 2, 1, 1])] {
            for u in [0.0, 12.0, 310.5, 900.0, 61_000.0] {
                point!(table, large_samples::rank_sum(u, first, second, ties, continuity));
            }
        }
        for j in [0.0, 74.5, 137.0, 500.0] {
            point!(table, large_samples::jonckheere(j, &[6, 5, 5, 4], &[1; 20], continuity));
            point!(table, large_samples::jonckheere(j, &[20, 30, 25], &[5; 15], continuity));
        }
    }
    for mean_ranks in [&[8.0, 12.0, 13.0], &[5.5, 10.25, 17.0]] {
        for (sizes, ties) in [(&[8, 6, 7], &[][..]), (&[8, 6, 7], &[2, 4, 1, 5, 9]), (&[4, 4, 13], &[20, 1])]
        {
            point!(table, large_samples::kruskal_wallis(mean_ranks, sizes, ties));
        }
    }
}

fn add_kruskal_wallis(table: &mut Table) {
    // Ranks without and with ties, doubled.
    let plain = [2, 4, 6, 8, 10, 12, 14, 16, 18, 20];
    let tied = [3, 3, 6, 9, 9, 12, 15, 15, 18, 20];
    for ranks in [&plain, &tied] {
        for (sizes, first) in [(&[4, 3, 3][..], 24), (&[4, 3, 3], 40), (&[2, 8], 7), (&[5, 5], 33)] {
            let sum: u32 = ranks.iter().sum();
            let rest = sum - first;
            let sums =
                if sizes.len() == 2 { vec![first, rest] } else { vec![first, rest / 2, rest - rest / 2] };
            point!(table, rank_counts::kruskal_wallis(ranks, sizes, &sums));
        }
    }
}
