using Pipeline.Apparatus;
using Pipeline.Response;

namespace Pipeline.Predictions;

/// <summary>Counts of single molecules against arrival time.</summary>
/// <remarks>The same yield and transit as the response matrix, transverse Doppler shifts by the probe's spread.</remarks>
sealed class MoleculeArrival(Setup setup, TickBins ticks) : IMoleculeResponse
{
    readonly YieldTable _yield = new(setup);
    readonly TimeShares _times = new(setup, ticks);

    public int Room => _times.Room;

    public void Fill(Crossings crossings, int k, Footprint footprint)
    {
        double speed = crossings.Speed[k];
        (double counts, double pumping) = _yield.At(speed);
        _times.Fill(crossings.Time[k], speed, pumping);
        footprint.Clear();
        for (int n = 0; n < _times.Count; n++) footprint.Add(_times.Bin(n), counts * _times.Share(n), counts);
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
