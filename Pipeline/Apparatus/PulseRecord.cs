using System.Globalization;
using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>The mean record of a channel that sees the pulse near the source.</summary>
/// <param name="Where">Name of the file, for faults.</param>
/// <param name="Times">[n] after the trigger, s, rising.</param>
/// <param name="Signal">[n] proportional to molecules, any unit.</param>
public sealed record PulseRecord(string Where, double[] Times, double[] Signal)
{
    /// <summary>Fewest samples that tell a noise.</summary>
    const int FewestBaseline = 8;
    const double Clear = 5, Ended = 0.02, Beyond = 0.02;

    /// <summary>The pulse at the plane where it was measured: baseline taken off, normalised, negative samples kept. Its mean time (in
    /// <see cref="EmissionProfile.Delay"/>) and its width (in <see cref="TemplateEmission.Stretch"/>) are as uncertain as the noise of the
    /// baseline makes them.</summary>
    /// <param name="baselineUntil">No molecules before this time, s; null: no baseline, and so no noise is known.</param>
    /// <exception cref="DataFaultException">The record holds no clear and complete pulse.</exception>
    public TemplateEmission ToEmission(double? baselineUntil)
    {
        int quiet = baselineUntil is { } until ? Times.Count(t => t < until) : 0;
        if (baselineUntil is not null && (quiet < FewestBaseline || quiet > Times.Length - 2))
            throw new DataFaultException(Where, $"{quiet} of {Times.Length} samples before baseline_until", $"at least {FewestBaseline}, and the pulse after them", "correct baseline_until, or record from an earlier time");
        var noise = new BaselineNoise(Signal[..quiet]);
        // before baseline_until there are no molecules: the pulse begins with the last sample of the baseline
        int first = Math.Max(0, quiet - 1);
        double[] times = Times[first..], signal = [.. Signal[first..].Select(s => s - noise.Mean)];
        PulseNoise pulse = PulseNoise.Of(times, signal, noise);
        if (!(pulse.Area > Clear * pulse.AreaSigma))
            throw new DataFaultException(Where, Text($"no signal above the baseline: an integral of {pulse.Area:G3} ± {pulse.AreaSigma:G3}"), Text($"a pulse of at least {Clear} of its standard errors, upwards"), "average more shots, check the column, or change the sign of a signal that goes down");
        RefuseCut(signal, noise);
        PulseShape shape = PulseShape.OfSamples(times, signal);
        (double least, double most) = (double.PositiveInfinity, double.NegativeInfinity);
        foreach (double share in shape.Shares) (least, most) = (Math.Min(least, share), Math.Max(most, share));
        if (least < -Beyond || most > 1 + Beyond || !(shape.Variance() > 0))
            throw new DataFaultException(Where, Text($"a pulse whose share of molecules before a time goes from {least:F3} to {most:F3}"), Text($"between {-Beyond} and {1 + Beyond}"), "average more shots, end the record soon after the pulse, or correct baseline_until where the baseline drifts");
        return new TemplateEmission { Shape = shape, Delay = new Measured(0, pulse.MeanSigma), Stretch = new Measured(1, pulse.WidthSigma) };
    }

    /// <summary>The mean of the last fiftieth of the record must be small, within twice its noise.</summary>
    void RefuseCut(double[] signal, BaselineNoise noise)
    {
        int last = Math.Max(1, signal.Length / 50);
        double peak = signal.Max(), left = signal[^last..].Average();
        if (left - 2 * noise.Sigma * Math.Sqrt(noise.Correlation / last) > Ended * peak)
            throw new DataFaultException(Where, Text($"a record that ends at {100 * left / peak:F1} % of the peak of its pulse"), Text($"{100 * Ended} % or less"), "record for longer, or state an analytic profile");
    }

    static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}

/// <summary>Mean and scatter of samples without molecules.</summary>
/// <remarks>Samples of a filtered channel follow each other: with a correlation rho between neighbours, n of them tell as much as
/// n (1 - rho)/(1 + rho) independent ones (first-order autoregression); sums over a pulse that is long against the filter scatter accordingly.</remarks>
sealed class BaselineNoise
{
    public BaselineNoise(double[] samples)
    {
        if (samples.Length == 0) return;
        Count = samples.Length;
        Mean = samples.Average();
        double square = samples.Sum(s => (s - Mean) * (s - Mean)), next = samples.Zip(samples.Skip(1), (a, b) => (a - Mean) * (b - Mean)).Sum();
        Sigma = Math.Sqrt(square / (Count - 1));
        double rho = square > 0 ? Math.Clamp(next / square, 0, 0.95) : 0;
        Correlation = (1 + rho) / (1 - rho);
    }

    public int Count { get; }
    public double Mean { get; }
    public double Sigma { get; }
    /// <summary>Factor on the variance of sums.</summary>
    public double Correlation { get; } = 1;
}

/// <summary>What noise does to area, mean time and width of a pulse.</summary>
/// <param name="Area">Integral of the signal.</param>
/// <param name="AreaSigma">Its standard error.</param>
/// <param name="MeanSigma">Standard error of the mean time, s.</param>
/// <param name="WidthSigma">Relative standard error of the rms width.</param>
readonly record struct PulseNoise(double Area, double AreaSigma, double MeanSigma, double WidthSigma)
{
    /// <remarks>Linear propagation through trapezoid sums; the noise of the baseline's mean moves all samples together.</remarks>
    public static PulseNoise Of(double[] times, double[] signal, BaselineNoise noise)
    {
        int n = times.Length;
        double[] weight = [.. Enumerable.Range(0, n).Select(i => 0.5 * (times[Math.Min(i + 1, n - 1)] - times[Math.Max(i - 1, 0)]))];
        double Sum(Func<int, double> of) => Enumerable.Range(0, n).Sum(i => weight[i] * signal[i] * of(i));
        double Error(Func<int, double> of)
        {
            double own = 0, common = 0;
            for (int i = 0; i < n; i++) (own, common) = (own + Math.Pow(weight[i] * of(i), 2), common + weight[i] * of(i));
            return noise.Count == 0 ? 0 : noise.Sigma * Math.Sqrt(noise.Correlation * (own + common * common / noise.Count));
        }
        double area = Sum(_ => 1), mean = Sum(i => times[i]) / area, variance = Sum(i => Math.Pow(times[i] - mean, 2)) / area;
        return new PulseNoise(area, Error(_ => 1), Error(i => times[i] - mean) / area, 0.5 * Error(i => Math.Pow(times[i] - mean, 2) - variance) / (area * variance));
    }
}
