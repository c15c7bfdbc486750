using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Predictions;

/// <summary>Puts simulated molecules through the instrument, one by one: straight flight to the probe, acceptance, transit, photons.</summary>
/// <remarks>Works where arrival time and speed have no unique relation, for arrival times, Doppler scans and maps, as the axis says.</remarks>
public sealed class PredictionFold
{
    readonly MoleculeList _list;
    readonly SignalAxis _axis;
    readonly VelocityGrid _grid;
    readonly TickBins _ticks;
    readonly ScanTables _tables;

    /// <param name="list">Molecules.</param>
    /// <param name="axis">Bins of the signal.</param>
    /// <param name="grid">Cells for the picture of the speeds.</param>
    public PredictionFold(MoleculeList list, SignalAxis axis, VelocityGrid grid) =>
        (_list, _axis, _grid, _ticks, _tables) = (axis.Points.Count > 0 ? list.BySpeed() : list, axis, grid, new TickBins(axis), new ScanTables(axis));

    /// <summary>Whether predictions fold differently in both setups: how and when molecules left does not matter, for they come with their times.</summary>
    public static bool TellsApart(Setup a, Setup b) =>
        a != b with { Emission = a.Emission, Beamline = b.Beamline with { Decelerator = a.Beamline.Decelerator } };

    /// <param name="setup">The instrument.</param>
    /// <param name="stretch">Factors on all molecules; null for the prediction itself.</param>
    /// <exception cref="DataFaultException">No molecule reaches the probe inside the acceptance.</exception>
    public FoldedPrediction Fold(Setup setup, Stretch? stretch = null)
    {
        (Crossings crossings, IMoleculeResponse response) = Prepare(setup, stretch ?? Stretch.None);
        var footprint = new Footprint(response.Room);
        double[] signal = new double[_axis.Bins], variance = new double[_axis.Bins];
        for (int k = 0; k < crossings.Count; k++)
        {
            double weight = crossings.Weight[k];
            response.Fill(crossings, k, footprint);
            for (int n = 0; n < footprint.Count; n++)
            {
                double counts = weight * footprint.Counts[n];
                signal[footprint.Bins[n]] += counts;
                // the times of one molecule vary together: its whole square is shared out, so that the variance of their sum is right
                variance[footprint.Bins[n]] += counts * weight * footprint.Whole[n];
            }
        }
        // the undershoot's own share of the variance is smaller by bin width over coupling time, and left out
        if (_axis.Points.Count == 0) Coupling.Apply(signal, _axis, setup.Detector.CouplingTime.Value);
        return Summary(crossings, setup.CaptureSpeed, signal, variance);
    }

    /// <summary>Covariance of groups of bins from the finite number of simulated molecules: one molecule is seen at many points of a scan, so that these vary together.</summary>
    /// <param name="setup">The instrument.</param>
    /// <param name="groups">[bins] number of the group; negative: none.</param>
    /// <param name="factors">[bins] by which counts are multiplied.</param>
    /// <returns>[groups, groups].</returns>
    public double[,] Covariance(Setup setup, IReadOnlyList<int> groups, IReadOnlyList<double> factors)
    {
        (Crossings crossings, IMoleculeResponse response) = Prepare(setup, Stretch.None);
        var footprint = new Footprint(response.Room);
        int count = groups.Max() + 1;
        var covariance = new double[count, count];
        var parts = new double[count];
        for (int k = 0; k < crossings.Count; k++)
        {
            response.Fill(crossings, k, footprint);
            Array.Clear(parts);
            (int low, int high) = (count, -1);
            for (int n = 0; n < footprint.Count; n++)
            {
                int bin = footprint.Bins[n], group = groups[bin];
                if (group < 0) continue;
                parts[group] += crossings.Weight[k] * factors[bin] * footprint.Counts[n];
                (low, high) = (Math.Min(low, group), Math.Max(high, group));
            }
            for (int a = low; a <= high; a++)
                for (int b = low; b <= a; b++) covariance[a, b] += parts[a] * parts[b];
        }
        for (int a = 0; a < count; a++)
            for (int b = 0; b < a; b++) covariance[b, a] = covariance[a, b];
        return covariance;
    }

    (Crossings, IMoleculeResponse) Prepare(Setup setup, Stretch stretch)
    {
        var crossings = new Crossings(_list, setup, stretch);
        if (!(crossings.Weight.Sum() > 0))
            throw new DataFaultException("prediction", $"none of {_list.Count} molecules inside the acceptance at the probe",
                "molecules that reach the probe", "check plane, units and acceptance");
        return (crossings, _axis.Points.Count > 0 ? new MoleculeScan(setup, _axis, _ticks, _tables, crossings) : new MoleculeArrival(setup, _ticks));
    }

    FoldedPrediction Summary(Crossings crossings, double capture, double[] signal, double[] variance)
    {
        (double weight, double squares, double speed, double below) = (0, 0, 0, 0);
        var spectrum = new double[_grid.Cells];
        for (int k = 0; k < crossings.Count; k++)
        {
            (double w, double v) = (crossings.Weight[k], crossings.Speed[k]);
            (weight, squares, speed) = (weight + w, squares + w * w, speed + w * v);
            if (v < capture) below += w;
            int cell = (int)Math.Floor((v - _grid.From) / _grid.Step);
            if (cell >= 0 && cell < spectrum.Length) spectrum[cell] += w;
        }
        return new()
        {
            Signal = signal, Variance = variance, EffectiveSize = weight * weight / squares, Molecules = weight, MeanSpeed = speed / weight,
            BelowCapture = below, Spectrum = spectrum, Outside = crossings.Outside,
        };
    }
}
