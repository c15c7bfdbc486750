using System.Globalization;
using Pipeline.Reduction;

namespace Pipeline.Fitting;

/// <summary>A scan with its fit, for the positions of lines in parts of it.</summary>
/// <param name="Window">The data.</param>
/// <param name="Replicas">For the error.</param>
/// <param name="PerShot">[bins of the window] fitted counts a shot with the zero of the axis moved by this, Hz.</param>
sealed record FittedScan(FitWindow Window, Replicas Replicas, Func<double, double[]> PerShot)
{
    /// <summary>Hz; small beside any line.</summary>
    const double Step = 1e5;

    /// <summary>Position of the lines in the later points less that in the others, in words; null where the lines stand where the scan turns.</summary>
    /// <param name="axis">The scan.</param>
    /// <param name="late">[points] which are the later ones.</param>
    /// <remarks>Each half has an amplitude of its own, and is moved to first order: counts = a model + shift d model/d zero, by weighted least
    /// squares. The model is that of both halves together, so that it takes neither's side.</remarks>
    public string? Compare(SignalAxis axis, bool[] late)
    {
        double[] model = PerShot(0), slope = [.. PerShot(Step).Zip(PerShot(-Step), (up, down) => (up - down) / (2 * Step))];
        var (early, later) = (new LineShift(Window, model, slope, Places(false)), new LineShift(Window, model, slope, Places(true)));
        // [bins of the window] place in the run; NaN in the other half
        double[] Places(bool side) => [.. Enumerable.Range(0, Window.Count).Select(i => (Window.First + i) / axis.TimeBins).Select(p => late[p] == side ? axis.Order[p] : double.NaN)];
        double apart = later.Order - early.Order;
        if (!(apart >= ScanDrift.Apart)) return null;
        double Difference(FitWindow window) => 1e-6 * (later.Of(window) - early.Of(window));
        double found = Difference(Window), error = Math.Max(Math.Sqrt(Replicas.Variance(Replicas.Map(Difference))), 1e-6 * double.Hypot(early.Error, later.Error));
        if (!double.IsFinite(found) || !double.IsFinite(error)) return null;
        string beyond = Math.Abs(found) > 3 * error ? ", more than three standard errors: look at the laser, and state axis_drift" : "";
        return string.Create(CultureInfo.InvariantCulture,
            $"up and down differ by {found:F2} ± {error:F2} MHz (lines of the later half less those of the earlier), like a drift of the laser by {-found / apart:F2} ± {error / apart:F2} MHz over the run{beyond}");
    }

    /// <summary>Shift of the lines in the points of one half.</summary>
    sealed class LineShift
    {
        readonly double[] _model, _weights;

        public LineShift(FitWindow w, double[] model, double[] slope, double[] places)
        {
            int[] bins = [.. Enumerable.Range(0, w.Count).Where(i => double.IsFinite(places[i]))];
            double Mean(double[] rate, int i) => w.Exposure[i] * rate[i];
            double[] inverse = [.. Enumerable.Range(0, w.Count).Select(i => 1 / w.Variance(i, Mean(model, i) + w.Background[i]))];
            double own = bins.Sum(i => inverse[i] * Mean(model, i) * Mean(model, i)), shared = bins.Sum(i => inverse[i] * Mean(model, i) * Mean(slope, i));
            // the slope without what an amplitude explains
            double Clean(int i) => Mean(slope, i) - shared / own * Mean(model, i);
            double norm = bins.Sum(i => inverse[i] * Clean(i) * Mean(slope, i));
            (_model, _weights, Error) = (model, new double[w.Count], 1 / Math.Sqrt(norm));
            foreach (int i in bins) _weights[i] = inverse[i] * Clean(i) / norm;
            Order = bins.Sum(i => _weights[i] * Mean(slope, i) * places[i]);
        }

        /// <summary>Place in the run of the points that tell it.</summary>
        public double Order { get; }

        /// <summary>Standard error from counting, Hz.</summary>
        public double Error { get; }

        /// <summary>Hz.</summary>
        public double Of(FitWindow window) => _weights.Select((c, i) => c == 0 ? 0 : c * (window.Total[i] - window.Background[i] - window.Exposure[i] * _model[i])).Sum();
    }
}
