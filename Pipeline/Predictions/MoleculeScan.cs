using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Predictions;

/// <summary>Counts of single molecules against the laser's reading, and arrival time where the scan has more than one time bin.</summary>
/// <remarks>z is along the beam, x horizontal, and the laser propagates in their plane along (sin theta, 0, cos theta), theta the angle of the probe: a
/// molecule shifts the line by (vz cos theta + vx sin theta)/lambda. Its own vx stands for the probe's transverse speed spread; the laser's jitter
/// stays. A molecule that crosses outside the time bins leaves nothing. When in its transit a molecule shines is taken without pumping, as in the response
/// matrix of a scan.</remarks>
sealed class MoleculeScan : IMoleculeResponse
{
    /// <summary>Speeds that are told apart, m/s: none in a beam are beyond.</summary>
    const double Lowest = 0.5, Highest = 5000;
    readonly double _along, _across, _zero;
    readonly int _timeBins;
    readonly double[] _points;
    readonly ScanCounts _counts;
    readonly TimeShares _times;

    public MoleculeScan(Setup setup, SignalAxis axis, TickBins ticks, ScanTables tables, Crossings crossings)
    {
        (double sin, double cos) = Math.SinCos(setup.Probe.Angle.Value);
        (_along, _across) = (cos / setup.Species.Wavelength.Value, sin / setup.Species.Wavelength.Value);
        (_zero, _timeBins) = (setup.Probe.AxisZero.Value, axis.TimeBins);
        _points = new double[axis.Points.Count];
        _times = new TimeShares(setup, ticks);
        (double slow, double fast, double low, double high) = (Highest, Lowest, double.PositiveInfinity, double.NegativeInfinity);
        for (int k = 0; k < crossings.Count; k++)
        {
            double speed = Math.Clamp(crossings.Speed[k], Lowest, Highest), shift = Reading(crossings, k);
            (slow, fast, low, high) = (Math.Min(slow, speed), Math.Max(fast, speed), Math.Min(low, shift), Math.Max(high, shift));
        }
        _counts = tables.For(setup, (slow, fast), (low, high));
    }

    public int Room => _points.Length * _times.Room;

    public void Fill(Crossings crossings, int k, Footprint footprint)
    {
        footprint.Clear();
        _times.Fill(crossings.Time[k], crossings.Speed[k], pumping: 0);
        if (_times.Count == 0) return;
        _counts.Fill(crossings.Speed[k], Reading(crossings, k), _points);
        for (int p = 0; p < _points.Length; p++)
            for (int n = 0; n < _times.Count; n++) footprint.Add(p * _timeBins + _times.Bin(n), _points[p] * _times.Share(n), _points[p]);
    }

    /// <summary>Of the laser, where the molecule sees it on the line centroid, Hz.</summary>
    double Reading(Crossings crossings, int k) => _zero + crossings.Speed[k] * _along + crossings.Across[k] * _across;
}
