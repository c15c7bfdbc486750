using MathNet.Numerics.Distributions;
using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Response;
using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>The number below the capture velocity, with an interval that holds counting, background, yield and common causes.</summary>
static class BelowCaptureFinder
{
    public static BelowCapture Find(
        FitWindow window, ResponseMatrix response, Setup setup, FitSettings settings, double yieldScatter, EstimatorRun quoted)
    {
        double[] share = response.Grid.ShareBelow(setup.CaptureSpeed);
        var design = new Design(window, response);
        bool[] blind = design.Blind;
        double[] seen = [.. share.Select((s, c) => blind[c] ? 0 : s)];
        if (seen.Sum() <= 0)
            return new BelowCapture(setup.CaptureSpeed, double.NaN, null, "no velocity below capture is inside grid and fit window");
        LinearEstimate estimate = LinearEstimate.Of(window, response, quoted.Main, seen);
        Interval counts = SignalInterval.Profile(Math.Max(0, estimate.Counts), estimate.Background, estimate.BackgroundError, settings.Confidence);
        double z = Normal.InvCDF(0, 1, 0.5 * (1 + settings.Confidence)), value = Math.Max(0, estimate.Value);
        (double relative, double absolute) = Systematics(quoted, seen);
        double common = z * double.Hypot(relative, yieldScatter);
        (double lowest, double highest) = (estimate.Unit * counts.Low, estimate.Unit * counts.High);
        double high = value + double.Hypot(double.Hypot(highest - value, common * highest), z * absolute);
        // common factors cannot make nothing into something, nor the reverse: a lower end at zero stays
        double low = lowest == 0 ? 0 : Math.Max(0, value - double.Hypot(double.Hypot(value - lowest, common * value), z * absolute));
        Interval strict = new StrictBounds(design, quoted.Main.Means).Of(seen, settings.Confidence, settings.Seed);
        return new BelowCapture(setup.CaptureSpeed, estimate.Value, new Interval(low, high, settings.Confidence))
        {
            Strict = new Interval(strict.Low * Math.Max(0, 1 - common), strict.High * (1 + common), settings.Confidence),
        };
    }

    /// <summary>What moves all numbers alike, relative; and what moves molecules across the capture velocity, in molecules, where the fit
    /// has any there.</summary>
    static (double Relative, double Absolute) Systematics(EstimatorRun quoted, double[] share)
    {
        Quantity below = quoted.Quantity(r => r.Molecules.Zip(share, (n, s) => n * s).Sum()), all = quoted.Quantity(r => r.Moments.Number);
        double whole = all.Value > 0 ? all.Systematic / all.Value : 0, own = whole * below.Value;
        return (whole, below.Value > 2 * below.Statistical ? Math.Sqrt(Math.Max(0, below.Systematic * below.Systematic - own * own)) : 0);
    }
}
