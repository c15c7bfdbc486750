using Pipeline.Numerics;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>A linear quantity of the spectrum, such as the number below a speed, as a fixed weighted sum of the signal.</summary>
/// <param name="Value">Unbiased, and so of either sign.</param>
/// <param name="Counts">Weighted sum of the totals, in units of <paramref name="Unit"/>.</param>
/// <param name="Background">The same of the background.</param>
/// <param name="BackgroundError">Standard error of that sum from the common causes of the background, as far as the fit leaves it.</param>
/// <param name="Unit">What one count stands for: the quantity is Unit (Counts - Background).</param>
sealed record LinearEstimate(double Value, double Counts, double Background, double BackgroundError, double Unit)
{
    /// <summary>Generalised least squares without the bound at zero, weights from the means of a fit.</summary>
    /// <remarks>Profiling a non-negative spectrum instead finds molecules in every upward fluctuation of the background: its lower limits
    /// excluded a true zero in five of six runs. Cells are held by a prior ten times wider than the largest of them, so that the edge of
    /// the quantity, where cells cannot be told apart, does not blow up the noise.</remarks>
    /// <param name="window">The data.</param>
    /// <param name="response">The instrument.</param>
    /// <param name="fit">Whose means give the weights.</param>
    /// <param name="direction">[cells] weight of each cell's molecules in the quantity.</param>
    public static LinearEstimate Of(FitWindow window, ResponseMatrix response, FittedSpectrum fit, double[] direction)
    {
        var design = new Design(window, response);
        double[] variance = [.. fit.Means.Select((m, i) => window.Variance(i, Math.Max(m, 0.5 * window.Background[i])))];
        double[] inverse = [.. variance.Select(v => 1 / v)];
        double[] solution = SolveFor(design, inverse, fit.Molecules.Max(), direction);
        double[] bins = [.. design.Apply(solution).Zip(inverse, (a, w) => a * w)];
        double Sum(double[] values) => bins.Zip(values, (w, x) => w * x).Sum();
        double counting = bins.Zip(variance, (w, v) => w * w * v).Sum();
        double size = bins.Zip(fit.Means, (w, m) => Math.Abs(w) * Math.Max(m, 0)).Sum(), unit = size > 0 ? counting / size : 1;
        double causes = Math.Sqrt(window.Causes.Sum(c => Math.Pow(Sum(c), 2)));
        return new LinearEstimate(Sum(window.Total) - Sum(window.Background), Sum(window.Total) / unit, Sum(window.Background) / unit, causes / unit, unit);
    }

    /// <summary>Coefficients x with A x the weights of the estimate before division by variance.</summary>
    static double[] SolveFor(Design design, double[] inverse, double largest, double[] direction)
    {
        int n = design.Variables;
        var h = new double[n * n];
        design.AddNormal(inverse, h);
        double hold = 1 / Math.Pow(10 * Math.Max(largest, 1e-12), 2);
        for (int c = 0; c < design.Cells; c++) h[c * n + c] += hold;
        for (int k = design.Cells; k < n; k++) h[k * n + k] += 1;
        double[] x = [.. direction, .. new double[n - design.Cells]];
        if (!Cholesky.Factor(h, n, n)) throw new InvalidOperationException("the information of a held spectrum is positive definite");
        Cholesky.Solve(h, n, n, x);
        return x;
    }
}
