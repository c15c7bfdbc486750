using Pipeline.Numerics;
using static System.Math;

namespace Pipeline.Tests.Numerics;

/// <summary>The least-squares code of the fits on certified problems.</summary>
/// <remarks>Source: NIST/ITL Statistical Reference Datasets, nonlinear regression; data files in Reference/. Digits demanded: six in
/// parameters, four in standard deviations and in the sum of squares; Lanczos3, nearly degenerate by design, four in parameters.</remarks>
public class LeastSquaresTests
{
    /// <summary>A model value, with its derivatives put into the span.</summary>
    delegate double Model(double x, ReadOnlySpan<double> b, Span<double> d);

    [Theory]
    [InlineData("Gauss1", 6)]
    [InlineData("Gauss2", 6)]
    [InlineData("Gauss3", 6)]
    [InlineData("Lanczos3", 4)]
    [InlineData("Eckerle4", 6)]
    [InlineData("MGH17", 6)]
    [InlineData("Thurber", 6)]
    [InlineData("BoxBOD", 6)]
    [InlineData("Misra1a", 6)]
    public void Minimise_NistSet_ReachesCertifiedValuesFromBothStarts(string name, int digits)
    {
        var set = new NistSet(name);
        foreach (double[] start in (double[][])[set.Start1, set.Start2])
        {
            LeastSquaresResult fit = LeastSquares.Minimise(Problem(set, ModelOf(name)), set.X.Length, start);
            Assert.True(fit.Converged);
            double variance = fit.SumOfSquares / (set.X.Length - start.Length);
            double[] deviation = Deviations(fit, variance);
            for (int k = 0; k < start.Length; k++)
            {
                AssertDigits(set.Certified[k], fit.Parameters[k], digits);
                AssertDigits(set.Deviation[k], deviation[k], 4);
            }
            // Lanczos3 sums squares of 1e-5: differences of data given to 11 digits
            AssertDigits(set.SumOfSquares, fit.SumOfSquares, 4);
        }
    }

    [Fact]
    public void Minimise_MinimumBeyondBound_StopsAtBoundAndSaysSo()
    {
        // (x - 3)^2 + (y - 1)^2 with x at most 2
        static void Residual(ReadOnlySpan<double> b, Span<double> r, Span<double> j)
        {
            (r[0], r[1]) = (b[0] - 3, b[1] - 1);
            if (!j.IsEmpty) (j[0], j[1], j[2], j[3]) = (1, 0, 0, 1);
        }
        LeastSquaresResult fit = LeastSquares.Minimise(Residual, 2, [0, 0], [-5, -5], [2, 5]);
        Assert.Equal(2, fit.Parameters[0]);
        // the sum of squares is flat in double precision below sqrt(1e-16) of its own size
        Assert.Equal(1, fit.Parameters[1], 8);
        Assert.Equal([true, false], fit.AtBound);
    }

    static ResidualFunction Problem(NistSet set, Model model) => (b, r, j) =>
    {
        Span<double> d = stackalloc double[b.Length];
        for (int i = 0; i < set.X.Length; i++)
        {
            r[i] = model(set.X[i], b, d) - set.Y[i];
            if (!j.IsEmpty) d.CopyTo(j[(i * b.Length)..]);
        }
    };

    static double[] Deviations(LeastSquaresResult fit, double variance)
    {
        int p = fit.Parameters.Length;
        var normal = MathNet.Numerics.LinearAlgebra.Matrix<double>.Build.DenseOfRowMajor(p, p, fit.Normal);
        return [.. normal.Inverse().Diagonal().Select(v => Sqrt(v * variance))];
    }

    static void AssertDigits(double certified, double found, int digits)
    {
        double reached = -Log10(Max(Abs(found - certified) / Abs(certified), 1e-16));
        Assert.True(reached >= digits, $"{found:G12} agrees with {certified:G12} to {reached:F1} digits, {digits} wanted");
    }

    static Model ModelOf(string name) => name switch
    {
        "Gauss1" or "Gauss2" or "Gauss3" => Gauss,
        "Lanczos3" => Lanczos,
        "Eckerle4" => Eckerle,
        "MGH17" => Mgh17,
        "Thurber" => Thurber,
        _ => Saturation,
    };

    static double Gauss(double x, ReadOnlySpan<double> b, Span<double> d)
    {
        double decay = Exp(-b[1] * x), z1 = (x - b[3]) / b[4], z2 = (x - b[6]) / b[7], g1 = Exp(-z1 * z1), g2 = Exp(-z2 * z2);
        (d[0], d[1], d[2], d[3]) = (decay, -b[0] * x * decay, g1, b[2] * g1 * 2 * z1 / b[4]);
        (d[4], d[5], d[6], d[7]) = (b[2] * g1 * 2 * z1 * z1 / b[4], g2, b[5] * g2 * 2 * z2 / b[7], b[5] * g2 * 2 * z2 * z2 / b[7]);
        return b[0] * decay + b[2] * g1 + b[5] * g2;
    }

    static double Lanczos(double x, ReadOnlySpan<double> b, Span<double> d)
    {
        double sum = 0;
        for (int k = 0; k < 6; k += 2)
        {
            double e = Exp(-b[k + 1] * x);
            (d[k], d[k + 1]) = (e, -b[k] * x * e);
            sum += b[k] * e;
        }
        return sum;
    }

    static double Eckerle(double x, ReadOnlySpan<double> b, Span<double> d)
    {
        double z = (x - b[2]) / b[1], g = Exp(-0.5 * z * z) / b[1];
        (d[0], d[1], d[2]) = (g, b[0] * g * (z * z - 1) / b[1], b[0] * g * z / b[1]);
        return b[0] * g;
    }

    static double Mgh17(double x, ReadOnlySpan<double> b, Span<double> d)
    {
        double e1 = Exp(-x * b[3]), e2 = Exp(-x * b[4]);
        (d[0], d[1], d[2], d[3], d[4]) = (1, e1, e2, -b[1] * x * e1, -b[2] * x * e2);
        return b[0] + b[1] * e1 + b[2] * e2;
    }

    static double Thurber(double x, ReadOnlySpan<double> b, Span<double> d)
    {
        double top = b[0] + x * (b[1] + x * (b[2] + x * b[3])), bottom = 1 + x * (b[4] + x * (b[5] + x * b[6]));
        for (int k = 0; k < 4; k++) d[k] = Pow(x, k) / bottom;
        for (int k = 4; k < 7; k++) d[k] = -top * Pow(x, k - 3) / (bottom * bottom);
        return top / bottom;
    }

    /// <summary>BoxBOD and Misra1a: b1 (1 - exp(-b2 x)).</summary>
    static double Saturation(double x, ReadOnlySpan<double> b, Span<double> d)
    {
        double e = Exp(-b[1] * x);
        (d[0], d[1]) = (1 - e, b[0] * x * e);
        return b[0] * (1 - e);
    }
}
