using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>Signal against arrival time: emission pulse, flight, transit through the probe, photons for each molecule.</summary>
/// <remarks>Each velocity cell holds its molecules evenly in v. It is cut into slices over which the flight time is even, so that the
/// share before an edge is a difference of the twice-integrated emission pulse: exact at the edges, and conserving molecules to rounding.
/// Edges of bins are moved by the trigger offset.</remarks>
public sealed class ArrivalResponse : IResponseMode
{
    public string Name => "arrival";
    public Scanned Scanned => Scanned.Nothing;

    public ResponseMatrix Build(Setup setup, string condition, SignalAxis axis, VelocityGrid grid)
    {
        FlightMap flight = setup.FlightFor(condition);
        if (flight is AmbiguousFlight)
            throw new DataFaultException($"condition \"{condition}\"", "flight \"not-unique\"", "a flight map that gives each arrival time its speed",
                "compare folded predictions, or measure a Doppler scan");
        var cells = new ArrivalCells(setup, flight, axis);
        var columns = new double[grid.Cells][];
        for (int c = 0; c < grid.Cells; c++)
        {
            columns[c] = cells.Column(grid.Edge(c), grid.Edge(c + 1));
            Coupling.Apply(columns[c], axis, setup.Detector.CouplingTime.Value);
        }
        return new ResponseMatrix(axis, grid, columns) { ArrivalTimes = setup.Detector.CouplingTime.Value > 0 ? null : cells.MeanTimes(grid) };
    }
}

/// <summary>Columns of one arrival response.</summary>
sealed class ArrivalCells
{
    const int SlicesAtLeast = 4, SlicesAtMost = 24;
    readonly EmissionProfile _emission;
    readonly FlightMap _flight;
    readonly double[] _edges;
    readonly DetectionYield _yield;
    readonly TransitProfile _transit;
    readonly double _detail;
    readonly bool _alike;
    readonly double _offset;
    ArrivalFront _slow, _fast;

    /// <param name="setup">The instrument.</param>
    /// <param name="flight">Speed to flight time.</param>
    /// <param name="axis">Time bins.</param>
    /// <param name="alike">Every molecule counts one, whatever its speed: when molecules arrive, not how bright they are.</param>
    public ArrivalCells(Setup setup, FlightMap flight, SignalAxis axis, bool alike = false)
    {
        _alike = alike;
        _emission = FilteredEmission.Of(setup.Emission, setup.Detector.TimeConstant.Value);
        _flight = flight;
        _offset = setup.Beamline.TriggerOffset.Value;
        _edges = [.. axis.EdgesInSeconds().Select(e => e + _offset)];
        _yield = new DetectionYield(setup);
        _transit = new TransitProfile(setup.Probe);
        _detail = Math.Max(0.1 * (_emission.Support.High - _emission.Support.Low), _edges[^1] * 1e-3);
        (_slow, _fast) = (new ArrivalFront(_edges), new ArrivalFront(_edges));
    }

    /// <summary>[cells + 1] recorded time of arrival at each edge, in the mean over the pulse, s.</summary>
    public double[] MeanTimes(VelocityGrid grid) => [.. grid.Edges().Select(v => _flight.TimeFor(v) + _emission.MeanTime - _offset)];

    /// <summary>[bins] counts for each molecule that is spread evenly over [from, to) m/s.</summary>
    public double[] Column(double from, double to)
    {
        var before = new double[_edges.Length];
        int slices = Math.Clamp((int)Math.Ceiling((_flight.TimeFor(from) - _flight.TimeFor(to)) / _detail), SlicesAtLeast, SlicesAtMost);
        _slow.Move(from, _flight.TimeFor(from), _transit, _emission);
        for (int s = 1; s <= slices; s++)
        {
            double fast = from + (to - from) * s / slices;
            _fast.Move(fast, _flight.TimeFor(fast), _transit, _emission);
            AddSlice(0.5 * (_slow.Speed + fast), 1.0 / slices, before);
            (_slow, _fast) = (_fast, _slow);
        }
        var column = new double[_edges.Length - 1];
        for (int b = 0; b < column.Length; b++) column[b] = before[b + 1] - before[b];
        return column;
    }

    /// <summary>Adds to each edge the counts that come before it, from molecules whose flight time is even between both fronts.</summary>
    void AddSlice(double speed, double share, double[] before)
    {
        double counts = _alike ? share : share * _yield.CountsAt(speed);
        Span<double> weights = stackalloc double[TransitProfile.Count];
        _transit.Weights(_alike ? 0 : _yield.PumpingAt(speed), weights);
        for (int k = 0; k < weights.Length; k++)
        {
            double part = counts * weights[k], early = _fast.Arrival(k), width = _slow.Arrival(k) - early;
            int from = _fast.First(k), to = _slow.End(k);
            for (int e = from; e < to; e++)
            {
                double arrived = width > 1e-12 ? (_fast.Integral(k, e) - _slow.Integral(k, e)) / width : _emission.CumulativeAt(_edges[e] - early);
                before[e] += part * Math.Clamp(arrived, 0, 1);
            }
            for (int e = to; e < _edges.Length; e++) before[e] += part;
        }
    }
}

/// <summary>Molecules of one speed: when they reach each place of the transit, and the integral of the pulse up to every edge. Shared by
/// the slices on either side of the speed.</summary>
sealed class ArrivalFront(double[] edges)
{
    readonly double[] _arrival = new double[TransitProfile.Count];
    readonly int[] _first = new int[TransitProfile.Count], _end = new int[TransitProfile.Count];
    readonly double[] _integral = new double[TransitProfile.Count * edges.Length];

    public double Speed { get; private set; }
    /// <summary>Flight time to a place, s.</summary>
    public double Arrival(int place) => _arrival[place];
    /// <summary>First edge after the start of the pulse.</summary>
    public int First(int place) => _first[place];
    /// <summary>First edge after its end.</summary>
    public int End(int place) => _end[place];
    /// <summary>Twice-integrated pulse at an edge, s.</summary>
    public double Integral(int place, int edge) => _integral[place * edges.Length + edge];

    public void Move(double speed, double flight, TransitProfile transit, EmissionProfile emission)
    {
        Speed = speed;
        (double low, double high) = emission.Support;
        for (int k = 0; k < _arrival.Length; k++)
        {
            double arrival = _arrival[k] = flight + transit.Places[k] / speed;
            (_first[k], _end[k]) = (LowerBound(arrival + low), LowerBound(arrival + high));
            Span<double> integral = _integral.AsSpan(k * edges.Length, edges.Length);
            integral[.._first[k]].Clear();
            for (int e = _first[k]; e < _end[k]; e++) integral[e] = emission.IntegratedCumulativeAt(edges[e] - arrival);
            for (int e = _end[k]; e < edges.Length; e++) integral[e] = edges[e] - arrival - emission.MeanTime;
        }
    }

    int LowerBound(double time)
    {
        int at = Array.BinarySearch(edges, time);
        return at >= 0 ? at : ~at;
    }
}
