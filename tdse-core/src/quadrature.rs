//! Nodes and weights of Gauss–Legendre quadrature.

/// Positive nodes on [-½, ½] and weights of six points (Abramowitz, Stegun, table 25.4).
const GAUSS_6: [(f64, f64); 3] = [
    (0.5 * 0.238_619_186_083_196_9, 0.5 * 0.467_913_934_572_691_04),
    (0.5 * 0.661_209_386_466_264_5, 0.5 * 0.360_761_573_048_138_6),
    (0.5 * 0.932_469_514_203_152, 0.5 * 0.171_324_492_379_170_35),
];

/// Six points on [0, 1] with their weights, whose sum is 1.
pub(crate) fn gauss_6() -> impl Iterator<Item = (f64, f64)> {
    GAUSS_6.iter().flat_map(|&(node, weight)| [(0.5 + node, weight), (0.5 - node, weight)])
}
