using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Response;

/// <summary>Signal against the laser's frequency, all arrival times together: the Doppler shift tells the speed, whenever a molecule left.</summary>
/// <remarks>Detuning = reading - zero - v cos(theta)/lambda - line offset, theta between laser propagation and velocity. Where flight is not
/// unique, or the pulse is unknown, every molecule is taken to arrive inside the window.</remarks>
public sealed class DopplerResponse : IResponseMode
{
    public string Name => "doppler";
    public Scanned Scanned => Scanned.Detuning;

    public ResponseMatrix Build(Setup setup, string condition, SignalAxis axis, VelocityGrid grid) => ScanColumns.Build(setup, setup.FlightFor(condition), axis, grid);
}

/// <summary>Signal against the laser's frequency and arrival time: each says the speed, and together when molecules left.</summary>
public sealed class MapResponse : IResponseMode
{
    public string Name => "map";
    public Scanned Scanned => Scanned.DetuningAndTime;

    public ResponseMatrix Build(Setup setup, string condition, SignalAxis axis, VelocityGrid grid)
    {
        FlightMap flight = setup.FlightFor(condition);
        if (flight is AmbiguousFlight)
            throw new DataFaultException($"condition \"{condition}\"", "flight \"not-unique\"", "a flight map that gives each speed its arrival time", "analyse this condition with mode = \"doppler\"");
        return ScanColumns.Build(setup, flight, axis, grid);
    }
}

/// <summary>Columns of a scan: counts at each point times the share that arrives in each time bin.</summary>
static class ScanColumns
{
    public static ResponseMatrix Build(Setup setup, FlightMap flight, SignalAxis axis, VelocityGrid grid)
    {
        if (axis.Points.Count == 0) throw new ArgumentOutOfRangeException(nameof(axis), 0, "must have points of a scan");
        if (setup.Detector.CouplingTime.Value > 0)
            throw new DataFaultException("[detector] coupling_time", "a coupled detector in a scan", "direct coupling", "take scans with a directly coupled detector, or measure arrival times");
        var yield = new ScanYield(setup, axis, grid.Edge(grid.Cells));
        ArrivalCells? arrival = flight is AmbiguousFlight || setup.Emission is UnknownEmission ? null : new ArrivalCells(setup, flight, axis, alike: true);
        var columns = new double[grid.Cells][];
        for (int c = 0; c < grid.Cells; c++)
        {
            double[] counts = yield.Counts(grid.Edge(c), grid.Edge(c + 1));
            double[]? shares = arrival?.Column(grid.Edge(c), grid.Edge(c + 1));
            double[] column = columns[c] = new double[axis.Bins];
            for (int bin = 0; bin < column.Length; bin++) column[bin] = counts[bin / axis.TimeBins] * (shares?[bin % axis.TimeBins] ?? 1.0 / axis.TimeBins);
        }
        return new ResponseMatrix(axis, grid, columns);
    }
}
