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
    /// <param name="window">The data.</param>
    /// <param name="response">The instrument.</param>
    /// <param name="fit">Whose means give the weights.</param>
    /// <param name="direction">[cells] weight of each cell's molecules in the quantity.</param>
    public static LinearEstimate Of(FitWindow window, ResponseMatrix response, FittedSpectrum fit, double[] direction)
    {
        var design = new Design(window, response);
        // smoothing would carry molecules across the edge of a narrow range
        var held = new HeldSpectrum(design, fit.Means, fit.Molecules, 0);
        double[] bins = [.. design.Apply(held.Solve(direction)).Zip(held.Weights, (a, w) => a * w)];
        double Sum(double[] values) => bins.Zip(values, (w, x) => w * x).Sum();
        double counting = bins.Zip(held.Variance, (w, v) => w * w * v).Sum();
        double size = bins.Zip(fit.Means, (w, m) => Math.Abs(w) * Math.Max(m, 0)).Sum(), unit = size > 0 ? counting / size : 1;
        double causes = Math.Sqrt(window.Causes.Sum(c => Math.Pow(Sum(c), 2)));
        return new LinearEstimate(Sum(window.Total) - Sum(window.Background), Sum(window.Total) / unit, Sum(window.Background) / unit, causes / unit, unit);
    }
}
