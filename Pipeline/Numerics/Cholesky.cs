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
            for (int i = j + 1; i < n; i++)
            {
                Span<double> rowI = a.Slice(i * stride, j + 1);
                rowI[j] = (rowI[j] - Dot(rowI[..j], rowJ[..j])) / root;
            }
        }
        return true;
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
            for (int k = 0; k < i; k++) b[k] -= factor[i * stride + k] * x;
        }
    }

    public static double Dot(ReadOnlySpan<double> a, ReadOnlySpan<double> b) => System.Numerics.Tensors.TensorPrimitives.Dot(a, b);
}
