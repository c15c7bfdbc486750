using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Fitting;

/// <summary>What the order of a scan says of a drift of the laser.</summary>
static class ScanDrift
{
    /// <summary>Correlation of reading and shot order, and twice the scan's distance from the middle of the run, below which a linear drift averages out.</summary>
    const double Balanced = 0.3;
    /// <summary>Share of the readings that a half must cover to be compared.</summary>
    const double Covered = 0.7;
    /// <summary>Part of the run that halves must be apart.</summary>
    public const double Apart = 0.2;

    /// <summary>Whether a linear drift is averaged out, and what the two halves of the scan say where they can be compared.</summary>
    /// <param name="condition">Its name.</param>
    /// <param name="axis">The scan.</param>
    /// <param name="setup">For the drift that is stated.</param>
    /// <param name="halves">The fit, for the comparison; null where there is none.</param>
    public static IEnumerable<string> Remarks(string condition, SignalAxis axis, Setup setup, FittedScan? halves)
    {
        double tilt = Tilt(axis), middle = axis.Order.Average();
        bool averaged = Math.Abs(tilt) < Balanced && 2 * Math.Abs(middle) < Balanced, stated = setup.Probe.AxisDrift != default;
        if (averaged) yield return string.Create(CultureInfo.InvariantCulture, $"{condition}: scanned up and down (reading and shot order correlate by {tilt:F2}): a linear drift of the laser is averaged out to first order");
        else
        {
            string why = Math.Abs(tilt) >= Balanced ? string.Create(CultureInfo.InvariantCulture, $"reading and shot order correlate by {tilt:F2}")
                : string.Create(CultureInfo.InvariantCulture, $"the scan lies {Math.Abs(middle):P0} of the run off its middle");
            yield return $"{condition}: {why}: a drift of the laser is not averaged out, and {(stated ? "stands in the budget as stated" : "no axis_drift is stated: it would move results unseen")}";
        }
        if (Halves(axis) is { } late && halves?.Compare(axis, late) is { } found)
            yield return $"{condition}: {found}{(stated ? ", beside the stated drift" : "")}";
    }

    /// <summary>Correlation of reading and order over all shots of the run: orders of shots are even between -0.5 and 0.5. The correlation of
    /// the means of points would call the smallest remainder of up and down a full one.</summary>
    static double Tilt(SignalAxis axis)
    {
        double middle = axis.Points.Average(), order = axis.Order.Average(), square = axis.Points.Average(p => (p - middle) * (p - middle));
        return square == 0 ? 0 : Math.Clamp(axis.Points.Zip(axis.Order, (p, o) => (p - middle) * (o - order)).Average() / Math.Sqrt(square / 12), -1, 1);
    }

    /// <summary>[points] whether each belongs to the later half; null where halves do not both cover the readings.</summary>
    static bool[]? Halves(SignalAxis axis)
    {
        double middle = 0.5 * (axis.Order.Min() + axis.Order.Max()), whole = axis.Points.Max() - axis.Points.Min();
        bool[] late = [.. axis.Order.Select(o => o > middle)];
        double[] early = [.. Part(axis.Points, false)], later = [.. Part(axis.Points, true)];
        bool both = early.Length >= 3 && later.Length >= 3 && early.Max() - early.Min() >= Covered * whole && later.Max() - later.Min() >= Covered * whole;
        return both && Part(axis.Order, true).Average() - Part(axis.Order, false).Average() >= Apart ? late : null;

        IEnumerable<double> Part(IReadOnlyList<double> values, bool side) => values.Where((_, k) => late[k] == side);
    }
}
