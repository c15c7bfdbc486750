using MathNet.Numerics.Distributions;
using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Response;

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
        StrictBound bound = StrictBounds.Find(window, response, seen, settings.Confidence);
        double z = Normal.InvCDF(0, 1, 0.5 * (1 + settings.Confidence));
        double relative = double.Hypot(RelativeSystematic(quoted, seen), yieldScatter) * z;
        double high = bound.Value + double.Hypot(bound.Interval.High - bound.Value, relative * bound.Interval.High);
        double low = Math.Max(0, bound.Value - double.Hypot(bound.Value - bound.Interval.Low, relative * bound.Value));
        // a lower end at zero stays: common factors cannot make nothing into something, nor the reverse
        return new BelowCapture(setup.CaptureSpeed, bound.Value, new Interval(bound.Interval.Low == 0 ? 0 : low, high, settings.Confidence));
    }

    /// <summary>Of the number below where the fit has one, else of the whole number: the efficiency is common to both.</summary>
    static double RelativeSystematic(EstimatorRun quoted, double[] share)
    {
        Quantity below = quoted.Quantity(m => m.Zip(share, (n, s) => n * s).Sum()), all = quoted.Quantity(m => m.Sum());
        double whole = all.Value > 0 ? all.Systematic / all.Value : 0;
        return below.Value > 2 * below.Statistical ? Math.Max(whole, below.Systematic / below.Value) : whole;
    }
}
