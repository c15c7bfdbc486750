using System.Numerics;
using System.Numerics.Tensors;
using System.Runtime.InteropServices;

namespace Pipeline.Numerics;

/// <summary>Solves small dense symmetric positive definite systems in place; row-major with an explicit stride.</summary>
static class Cholesky
{
    /// <summary>Replaces the lower triangle of <paramref name="a"/> by its factor.</summary>
    /// <param name="a">[n * stride] symmetric matrix; only the lower triangle is read.</param>
    /// <param name="n">Order.</param>
    /// <param name="stride">Elements between rows, at least n.</param>
    /// <returns>False where a pivot is not positive: the matrix is not positive definite to working precision.</returns>
    public static bool Factor(Span<double> a, int n, int stride)
    {
        for (int j = 0; j < n; j++)
        {
            Span<double> rowJ = a.Slice(j * stride, j + 1);
            double pivot = rowJ[j] - Dot(rowJ[..j], rowJ[..j]);
            if (!(pivot > 0)) return false;
            double root = Math.Sqrt(pivot);
            rowJ[j] = root;
            int i = j + 1;
            for (; i + 4 <= n; i += 4) EliminateFour(a[(i * stride)..], stride, rowJ);
            for (; i < n; i++)
            {
                Span<double> rowI = a.Slice(i * stride, j + 1);
                rowI[j] = (rowI[j] - Dot(rowI[..j], rowJ[..j])) / root;
            }
        }
        return true;
    }

    /// <summary>One column of the factor in four rows at once: each piece of the pivot's row is loaded once for all of them.</summary>
    /// <param name="rows">From the first of the four rows on.</param>
    /// <param name="stride">Elements between rows.</param>
    /// <param name="pivot">[j + 1] the finished row of the pivot.</param>
    static void EliminateFour(Span<double> rows, int stride, ReadOnlySpan<double> pivot)
    {
        int j = pivot.Length - 1;
        Span<double> r0 = rows[..(j + 1)], r1 = rows.Slice(stride, j + 1), r2 = rows.Slice(2 * stride, j + 1), r3 = rows.Slice(3 * stride, j + 1);
        ReadOnlySpan<Vector<double>> p = MemoryMarshal.Cast<double, Vector<double>>(pivot[..j]);
        ReadOnlySpan<Vector<double>> v0 = MemoryMarshal.Cast<double, Vector<double>>(r0)[..p.Length], v1 = MemoryMarshal.Cast<double, Vector<double>>(r1)[..p.Length];
        ReadOnlySpan<Vector<double>> v2 = MemoryMarshal.Cast<double, Vector<double>>(r2)[..p.Length], v3 = MemoryMarshal.Cast<double, Vector<double>>(r3)[..p.Length];
        Vector<double> s0 = default, s1 = default, s2 = default, s3 = default;
        for (int k = 0; k < p.Length; k++)
        {
            Vector<double> at = p[k];
            s0 = Vector.FusedMultiplyAdd(at, v0[k], s0);
            s1 = Vector.FusedMultiplyAdd(at, v1[k], s1);
            s2 = Vector.FusedMultiplyAdd(at, v2[k], s2);
            s3 = Vector.FusedMultiplyAdd(at, v3[k], s3);
        }
        (double d0, double d1, double d2, double d3) = (Vector.Sum(s0), Vector.Sum(s1), Vector.Sum(s2), Vector.Sum(s3));
        for (int k = p.Length * Vector<double>.Count; k < j; k++)
            (d0, d1, d2, d3) = (d0 + pivot[k] * r0[k], d1 + pivot[k] * r1[k], d2 + pivot[k] * r2[k], d3 + pivot[k] * r3[k]);
        double root = pivot[j];
        (r0[j], r1[j], r2[j], r3[j]) = ((r0[j] - d0) / root, (r1[j] - d1) / root, (r2[j] - d2) / root, (r3[j] - d3) / root);
    }

    /// <summary>Solves L L^T x = b in place.</summary>
    /// <param name="factor">Result of <see cref="Factor"/>.</param>
    /// <param name="n">Order.</param>
    /// <param name="stride">Elements between rows.</param>
    /// <param name="b">[n] right-hand side; holds the solution afterwards.</param>
    public static void Solve(ReadOnlySpan<double> factor, int n, int stride, Span<double> b)
    {
        for (int i = 0; i < n; i++)
            b[i] = (b[i] - Dot(factor.Slice(i * stride, i), b[..i])) / factor[i * stride + i];
        for (int i = n - 1; i >= 0; i--)
        {
            double x = b[i] /= factor[i * stride + i];
            TensorPrimitives.MultiplyAdd(factor.Slice(i * stride, i), -x, b[..i], b[..i]);
        }
    }

    public static double Dot(ReadOnlySpan<double> a, ReadOnlySpan<double> b) => TensorPrimitives.Dot(a, b);
}
