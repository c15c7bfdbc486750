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

    public ResponseMatrix Build(Setup setup, string condition, SignalAxis axis, VelocityGrid grid)
    {
        FlightMap flight = setup.FlightFor(condition);
        if (flight is AmbiguousFlight)
            throw new DataFaultException($"condition \"{condition}\"", "flight \"not-unique\"", "a flight map that gives each arrival time its speed",
                "compare folded predictions, or measure a Doppler scan");
        var cells = new ArrivalCells(setup, flight, axis);
        var columns = new double[grid.Cells][];
        for (int c = 0; c < grid.Cells; c++) columns[c] = cells.Column(grid.Edge(c), grid.Edge(c + 1));
        return new ResponseMatrix(axis, grid, columns);
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
    readonly double _emissionLength;

    public ArrivalCells(Setup setup, FlightMap flight, SignalAxis axis)
    {
        _emission = setup.Emission;
        _flight = flight;
        _edges = [.. axis.EdgesInSeconds().Select(e => e + setup.Beamline.TriggerOffset.Value)];
        _yield = new DetectionYield(setup);
        _transit = new TransitProfile(setup.Probe);
        _emissionLength = _emission.Support.High - _emission.Support.Low;
    }

    /// <summary>[bins] counts for each molecule that is spread evenly over [from, to) m/s.</summary>
    public double[] Column(double from, double to)
    {
        var before = new double[_edges.Length];
        double span = _flight.TimeFor(from) - _flight.TimeFor(to);
        double detail = Math.Max(0.1 * _emissionLength, _edges[^1] * 1e-3);
        int slices = Math.Clamp((int)Math.Ceiling(span / detail), SlicesAtLeast, SlicesAtMost);
        for (int s = 0; s < slices; s++)
        {
            double slow = from + (to - from) * s / slices, fast = from + (to - from) * (s + 1) / slices;
            AddSlice(slow, fast, before, 1.0 / slices);
        }
        var column = new double[_edges.Length - 1];
        for (int b = 0; b < column.Length; b++) column[b] = before[b + 1] - before[b];
        return column;
    }

    /// <summary>Adds to each edge the counts that come before it.</summary>
    void AddSlice(double slow, double fast, double[] before, double share)
    {
        double speed = 0.5 * (slow + fast), counts = share * _yield.CountsAt(speed);
        double early = _flight.TimeFor(fast), late = _flight.TimeFor(slow);
        Span<double> weights = stackalloc double[TransitProfile.Count];
        _transit.Weights(_yield.PumpingAt(speed), weights);
        for (int k = 0; k < weights.Length; k++)
        {
            double shift = _transit.Places[k] / speed;
            AddPulse(early + shift, late + shift, counts * weights[k], before);
        }
    }

    /// <summary>Adds molecules whose flight time is even over [early, late).</summary>
    void AddPulse(double early, double late, double counts, double[] before)
    {
        (double low, double high) = _emission.Support;
        int from = LowerBound(early + low), to = LowerBound(late + high);
        double width = late - early;
        for (int e = from; e < to; e++)
        {
            double share = width > 1e-12
                ? (_emission.IntegratedCumulativeAt(_edges[e] - early) - _emission.IntegratedCumulativeAt(_edges[e] - late)) / width
                : _emission.CumulativeAt(_edges[e] - early);
            before[e] += counts * Math.Clamp(share, 0, 1);
        }
        for (int e = to; e < _edges.Length; e++) before[e] += counts;
    }

    int LowerBound(double time)
    {
        int at = Array.BinarySearch(_edges, time);
        return at >= 0 ? at : ~at;
    }
}
