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
        (Interval counts, string rule) = CountsOf(estimate, settings.Confidence);
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
            Rule = rule,
            Share = ShareOf(estimate, counts, quoted),
            Strict = new Interval(strict.Low * Math.Max(0, 1 - common), strict.High * (1 + common), settings.Confidence),
        };
    }

    /// <summary>Counts up to which the ordering of Feldman and Cousins is used.</summary>
    const double Few = 30;

    /// <summary>Error of the background, relative to the Poisson error of the counts, up to which it counts as known.</summary>
    const double Known = 0.15;

    /// <summary>Few counts on a background that is known: likelihood-ratio ordering, between whole counts in proportion, because the counts are a weighted
    /// sum. Else the profile likelihood with the background's error.</summary>
    static (Interval Counts, string Rule) CountsOf(LinearEstimate estimate, double confidence)
    {
        double counts = Math.Max(0, estimate.Counts), background = Math.Max(0, estimate.Background);
        if (counts > Few || estimate.BackgroundError > Known * Math.Sqrt(Math.Max(background, 1)))
            return (SignalInterval.Profile(counts, estimate.Background, estimate.BackgroundError, confidence), "profile likelihood with the background's error");
        int whole = (int)counts;
        double part = counts - whole;
        Interval less = FeldmanCousins.Of(whole, background, confidence), more = FeldmanCousins.Of(whole + 1, background, confidence);
        return (new Interval(less.Low + part * (more.Low - less.Low), less.High + part * (more.High - less.High), confidence), "ordering of Feldman and Cousins, the background known");
    }

    /// <summary>Of all molecules seen: what scales numbers cancels; the number itself is far better known than what is below.</summary>
    static Interval? ShareOf(LinearEstimate estimate, Interval counts, EstimatorRun quoted)
    {
        Quantity number = quoted.Quantity(r => r.Moments.Number);
        return number.Value > 5 * number.Statistical
            ? new Interval(Math.Min(1, estimate.Unit * counts.Low / number.Value), Math.Min(1, estimate.Unit * counts.High / number.Value), counts.Confidence) : null;
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
