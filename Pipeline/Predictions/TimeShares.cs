using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Predictions;

/// <summary>Time bins of the whole sampling ticks of an axis: finds the bin of a time without a search.</summary>
sealed class TickBins
{
    readonly double _origin, _tick;
    readonly int[] _bins;

    public TickBins(SignalAxis axis)
    {
        (_origin, _tick) = (axis.EdgeSeconds(0), axis.TickSeconds);
        _bins = [.. Enumerable.Range(0, axis.TimeBins).SelectMany(b => Enumerable.Repeat(b, axis.Edges[b + 1] - axis.Edges[b]))];
    }

    /// <summary>-1 outside all bins.</summary>
    public int Of(double seconds)
    {
        double place = Math.Floor((seconds - _origin) / _tick);
        return place >= 0 && place < _bins.Length ? _bins[(int)place] : -1;
    }
}

/// <summary>The time bins in which one molecule's photons are recorded: its transit through the light, and the delay of the detector.</summary>
sealed class TimeShares
{
    readonly TickBins _ticks;
    readonly TransitProfile _transit;
    readonly double[] _delays, _weights = new double[TransitProfile.Count], _shares;
    readonly int[] _bins;

    public TimeShares(Setup setup, TickBins ticks)
    {
        _ticks = ticks;
        _transit = new TransitProfile(setup.Probe);
        _delays = Delays(setup.Detector.TimeConstant.Value);
        (_bins, _shares) = (new int[Room], new double[Room]);
    }

    /// <summary>Most bins of one molecule.</summary>
    public int Room => TransitProfile.Count * _delays.Length;
    public int Count { get; private set; }
    public int Bin(int n) => _bins[n];
    /// <summary>Sum to one where all of the molecule's photons fall inside the bins.</summary>
    public double Share(int n) => _shares[n];

    /// <param name="crossing">Recorded time at the middle of the probe, s.</param>
    /// <param name="speed">m/s.</param>
    /// <param name="pumping">Exposure over photon limit.</param>
    public void Fill(double crossing, double speed, double pumping)
    {
        Count = 0;
        _transit.Weights(pumping, _weights);
        for (int n = 0; n < _weights.Length; n++)
            foreach (double delay in _delays)
            {
                int bin = _ticks.Of(crossing + _transit.Places[n] / speed + delay);
                if (bin < 0) continue;
                if (Count == 0 || _bins[Count - 1] != bin) (_bins[Count], _shares[Count++]) = (bin, 0);
                _shares[Count - 1] += _weights[n] / _delays.Length;
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
}
