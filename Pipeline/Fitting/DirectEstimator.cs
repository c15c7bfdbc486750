using System.Globalization;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>Arrival time read as velocity: counts between the arrival times of a cell's edges, over the counts of one molecule there.</summary>
/// <remarks>Counts are shared by exact overlap of bins and cells, v = L / (t - mean emission time) on free flight, so none is lost and none is
/// clipped. The pulse, the transit and the detector's bandwidth are taken as short: what they do to number, mean and spread is found by
/// sending the result through the full response and back, and beyond the limits below the transform is not offered.</remarks>
sealed class DirectEstimator : ISpectrumEstimator
{
    /// <summary>Largest relative bias of number and mean, and of the spread, at which it is offered.</summary>
    const double MostBias = 0.01, MostBiasOfSpread = 0.1;

    public string Name => "direct";

    public FittedSpectrum Fit(FitWindow window, ResponseMatrix response)
    {
        double[] molecules = Transform(window, response, UnfoldedEstimator.Net(window));
        var design = new Design(window, response);
        double[] means = design.Means([.. molecules, .. new double[window.Causes.Length]]);
        SpectrumMoments found = SpectrumMoments.Of(response.Grid, molecules);
        SpectrumMoments again = SpectrumMoments.Of(response.Grid, Transform(window, response, [.. means.Zip(window.Background, (m, b) => m - b)]));
        (double number, double mean, double spread) = (again.Number / found.Number - 1, again.Mean - found.Mean, again.Spread - found.Spread);
        string bias = string.Create(CultureInfo.InvariantCulture, $"pulse, transit and bandwidth move its number by {100 * number:+0.0;-0.0} %, its mean by {mean:+0.00;-0.00} m/s and its spread by {spread:+0.00;-0.00} m/s");
        bool small = Math.Abs(number) <= MostBias && Math.Abs(mean) <= MostBias * found.Mean && Math.Abs(spread) <= MostBiasOfSpread * found.Spread;
        return new DirectSpectrum
        {
            Molecules = molecules, Moments = found, Means = means, Deviance = double.NaN, DegreesOfFreedom = double.NaN,
            Refusal = response.ArrivalTimes is null ? "arrival time alone does not tell the speed here" : small ? null : $"arrival time cannot be read as velocity: {bias}",
            Description = $"arrival time read as velocity; {bias}",
        };
    }

    /// <summary>[cells] molecules a shot from net counts.</summary>
    internal static double[] Transform(FitWindow window, ResponseMatrix response, double[] net)
    {
        var molecules = new double[response.Grid.Cells];
        if (response.ArrivalTimes is not { } times) return molecules;
        for (int c = 0; c < molecules.Length; c++)
        {
            (double early, double late) = (times[c + 1], times[c]);
            double counts = response.Sum(c), sum = 0;
            if (counts <= 0) continue;
            for (int i = 0; i < window.Count; i++)
            {
                double start = response.Axis.StartSeconds(window.First + i), end = response.Axis.EndSeconds(window.First + i), shared = Math.Min(end, late) - Math.Max(start, early);
                if (shared > 0) sum += net[i] / window.Exposure[i] * shared / (end - start);
            }
            molecules[c] = sum / counts;
        }
        return molecules;
    }
}

sealed class DirectSpectrum : FittedSpectrum
{
    public override Refitted Refit(FitWindow window, ResponseMatrix response)
    {
        double[] molecules = DirectEstimator.Transform(window, response, UnfoldedEstimator.Net(window));
        return new Refitted(molecules, SpectrumMoments.Of(response.Grid, molecules));
    }
}
