using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Predictions;

/// <summary>Puts simulated molecules through the instrument, one by one: straight flight to the probe, acceptance, transit, photons.</summary>
/// <remarks>Works where arrival time and speed have no unique relation. Uses the same yield and transit as the response matrix.</remarks>
public static class PredictionFold
{
    /// <param name="list">Molecules.</param>
    /// <param name="setup">The instrument.</param>
    /// <param name="axis">Bins of the signal.</param>
    /// <param name="grid">Cells for the picture of the speeds.</param>
    /// <param name="stretch">Factor on every arrival time; 1 for the prediction itself.</param>
    /// <exception cref="DataFaultException">No molecule reaches the probe inside the acceptance.</exception>
    public static FoldedPrediction Fold(MoleculeList list, Setup setup, SignalAxis axis, VelocityGrid grid, double stretch = 1)
    {
        var sums = new FoldSums(setup, axis, grid, stretch);
        for (int k = 0; k < list.Count; k++) sums.Add(list, k);
        if (!(sums.Weight > 0))
            throw new DataFaultException("prediction", $"none of {list.Count} molecules inside the acceptance at the probe",
                "molecules that reach the probe", "check plane, units and acceptance");
        return sums.Result();
    }
}

/// <summary>Running sums of one fold.</summary>
sealed class FoldSums
{
    readonly Setup _setup;
    readonly SignalAxis _axis;
    readonly VelocityGrid _grid;
    readonly double _stretch, _distance, _offset;
    readonly YieldTable _yield;
    readonly TransitProfile _transit;
    readonly double[] _edges, _signal, _variance, _spectrum, _weights = new double[TransitProfile.Count];
    readonly double[] _delays;
    double _squares, _speed, _below;
    int _outside;

    public FoldSums(Setup setup, SignalAxis axis, VelocityGrid grid, double stretch)
    {
        (_setup, _axis, _grid, _stretch) = (setup, axis, grid, stretch);
        _distance = setup.Beamline.SourceToProbe.Value;
        _offset = setup.Beamline.TriggerOffset.Value;
        _yield = new YieldTable(setup);
        _transit = new TransitProfile(setup.Probe);
        _delays = Delays(setup.Detector.TimeConstant.Value);
        _edges = axis.EdgesInSeconds();
        (_signal, _variance, _spectrum) = (new double[axis.Bins], new double[axis.Bins], new double[grid.Cells]);
    }

    public double Weight { get; private set; }

    public void Add(MoleculeList list, int k)
    {
        double flight = (_distance - list.Z[k]) / list.Vz[k], weight = list.Weight[k], speed = list.Vz[k];
        double x = list.X[k] + list.Vx[k] * flight, y = list.Y[k] + list.Vy[k] * flight;
        if (Math.Abs(x) > (_setup.Beamline.AcceptanceHalfWidthX ?? double.PositiveInfinity)
            || Math.Abs(y) > (_setup.Beamline.AcceptanceHalfWidthY ?? double.PositiveInfinity))
        {
            _outside++;
            return;
        }
        Weight += weight;
        _squares += weight * weight;
        _speed += weight * speed;
        if (speed < _setup.CaptureSpeed) _below += weight;
        int cell = (int)Math.Floor((speed - _grid.From) / _grid.Step);
        if (cell >= 0 && cell < _spectrum.Length) _spectrum[cell] += weight;
        Deposit(_stretch * (list.Time[k] + flight) - _offset, speed, weight);
    }

    void Deposit(double crossing, double speed, double weight)
    {
        (double counts, double pumping) = _yield.At(speed);
        _transit.Weights(pumping, _weights);
        for (int n = 0; n < _weights.Length; n++)
            foreach (double delay in _delays)
            {
                int at = Array.BinarySearch(_edges, crossing + _transit.Places[n] / speed + delay);
                int bin = at >= 0 ? at : ~at - 1;
                if (bin < 0 || bin >= _axis.Bins) continue;
                // the places of one molecule vary together: its whole square is shared out, so that the variance of the sum is right
                double share = _weights[n] / _delays.Length;
                _signal[bin] += weight * counts * share;
                _variance[bin] += weight * counts * weight * counts * share;
            }
    }

    /// <summary>Delays of a one-pole filter, equally likely: the mean of each twelfth of the exponential, so that their mean is exact.</summary>
    static double[] Delays(double timeConstant)
    {
        if (timeConstant == 0) return [0];
        const int Parts = 12;
        static double Beyond(double p) => p >= 1 ? 0 : (1 - p) * (1 - Math.Log(1 - p));
        return [.. Enumerable.Range(0, Parts).Select(k => timeConstant * Parts * (Beyond((double)k / Parts) - Beyond((k + 1.0) / Parts)))];
    }

    public FoldedPrediction Result()
    {
        // the undershoot's own share of the variance is smaller by bin width over coupling time, and left out
        Coupling.Apply(_signal, _axis, _setup.Detector.CouplingTime.Value);
        return new()
        {
            Signal = _signal,
            Variance = _variance,
            EffectiveSize = Weight * Weight / _squares,
            Molecules = Weight,
            MeanSpeed = _speed / Weight,
            BelowCapture = _below,
            Spectrum = _spectrum,
            Outside = _outside,
        };
    }
}

/// <summary>Yield and pumping by speed, tabulated so that a hundred thousand molecules cost as little as a few hundred.</summary>
/// <remarks>Even steps in log speed from 0.5 to 5,000 m/s, linear between: relative error below 1e-5.</remarks>
sealed class YieldTable
{
    const double Lowest = 0.5, Highest = 5000, Step = 0.005;
    readonly double[] _logCounts, _pumping;

    public YieldTable(Setup setup)
    {
        var yield = new DetectionYield(setup);
        int n = (int)Math.Ceiling(Math.Log(Highest / Lowest) / Step) + 2;
        (_logCounts, _pumping) = (new double[n], new double[n]);
        for (int k = 0; k < n; k++)
        {
            double speed = Lowest * Math.Exp(k * Step);
            (_logCounts[k], _pumping[k]) = (Math.Log(yield.CountsAt(speed)), yield.PumpingAt(speed));
        }
    }

    public (double Counts, double Pumping) At(double speed)
    {
        double place = Math.Log(Math.Clamp(speed, Lowest, Highest) / Lowest) / Step;
        int k = (int)place;
        double rest = place - k;
        return (Math.Exp(_logCounts[k] + rest * (_logCounts[k + 1] - _logCounts[k])), _pumping[k] + rest * (_pumping[k + 1] - _pumping[k]));
    }
}
