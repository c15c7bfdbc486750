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
        bool[] blind = new Design(window, response).Blind;
        double[] seen = [.. share.Select((s, c) => blind[c] ? 0 : s)];
        if (seen.Sum() <= 0)
            return new BelowCapture(setup.CaptureSpeed, double.NaN, null, "no velocity below capture is inside grid and fit window");
        LinearEstimate estimate = LinearEstimate.Of(window, response, quoted.Main, seen);
        Interval counts = SignalInterval.Profile(Math.Max(0, estimate.Counts), estimate.Background, estimate.BackgroundError, settings.Confidence);
        double z = Normal.InvCDF(0, 1, 0.5 * (1 + settings.Confidence)), value = Math.Max(0, estimate.Value);
        double common = z * double.Hypot(RelativeSystematic(quoted, seen), yieldScatter);
        (double lowest, double highest) = (estimate.Unit * counts.Low, estimate.Unit * counts.High);
        double high = value + double.Hypot(highest - value, common * highest);
        // common factors cannot make nothing into something, nor the reverse: a lower end at zero stays
        double low = lowest == 0 ? 0 : Math.Max(0, value - double.Hypot(value - lowest, common * value));
        return new BelowCapture(setup.CaptureSpeed, estimate.Value, new Interval(low, high, settings.Confidence));
    }

    /// <summary>Of the number below where the fit has one, else of the whole number: the efficiency is common to both.</summary>
    static double RelativeSystematic(EstimatorRun quoted, double[] share)
    {
        Quantity below = quoted.Quantity(r => r.Molecules.Zip(share, (n, s) => n * s).Sum()), all = quoted.Quantity(r => r.Moments.Number);
        double whole = all.Value > 0 ? all.Systematic / all.Value : 0;
        return below.Value > 2 * below.Statistical ? Math.Max(whole, below.Systematic / below.Value) : whole;
    }
}
