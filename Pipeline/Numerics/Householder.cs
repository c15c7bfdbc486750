namespace Pipeline.Numerics;

/// <summary>Linear least squares by Householder reflections.</summary>
/// <remarks>Golub and Van Loan, Matrix Computations, algorithm 5.2.1. The library's QR allocates a square Q of the order of the rows,
/// which a fit with hundreds of residuals does not need.</remarks>
static class Householder
{
    /// <summary>Minimises |A x - b|. A and b are overwritten.</summary>
    /// <param name="a">[rows * columns] row-major, of full column rank.</param>
    /// <param name="b">[rows].</param>
    /// <param name="rows">At least <paramref name="columns"/>.</param>
    /// <param name="columns">Number of unknowns.</param>
    /// <returns>[columns].</returns>
    public static double[] Solve(double[] a, double[] b, int rows, int columns)
    {
        for (int k = 0; k < columns; k++)
        {
            double norm = ColumnNorm(a, k, rows, columns);
            if (norm == 0) continue;
            double alpha = a[k * columns + k] > 0 ? -norm : norm;
            a[k * columns + k] -= alpha;
            double head = a[k * columns + k];
            for (int c = k + 1; c < columns; c++) Reflect(a, k, rows, columns, a, c, columns, -1 / (alpha * head));
            Reflect(a, k, rows, columns, b, 0, 1, -1 / (alpha * head));
            a[k * columns + k] = alpha;
        }
        var x = new double[columns];
        for (int k = columns - 1; k >= 0; k--)
        {
            double sum = b[k];
            for (int c = k + 1; c < columns; c++) sum -= a[k * columns + c] * x[c];
            double pivot = a[k * columns + k];
            x[k] = pivot == 0 ? 0 : sum / pivot;
        }
        return x;
    }

    /// <summary>Scaled by the largest element, so that squares neither overflow nor vanish.</summary>
    static double ColumnNorm(double[] a, int k, int rows, int columns)
    {
        (double largest, double sum) = (0, 0);
        for (int i = k; i < rows; i++) largest = Math.Max(largest, Math.Abs(a[i * columns + k]));
        if (largest == 0) return 0;
        for (int i = k; i < rows; i++) sum += a[i * columns + k] / largest * (a[i * columns + k] / largest);
        return largest * Math.Sqrt(sum);
    }

    /// <summary>Applies I - beta v v^T, v the part of column k from row k on, to one column of another array.</summary>
    static void Reflect(double[] a, int k, int rows, int columns, double[] target, int column, int stride, double beta)
    {
        double dot = 0;
        for (int i = k; i < rows; i++) dot += a[i * columns + k] * target[i * stride + column];
        dot *= beta;
        for (int i = k; i < rows; i++) target[i * stride + column] -= dot * a[i * columns + k];
    }
}
