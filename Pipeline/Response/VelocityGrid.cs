namespace Pipeline.Response;

/// <summary>Equal velocity cells, half-open.</summary>
public sealed record VelocityGrid
{
    /// <param name="from">Lower end, m/s, positive.</param>
    /// <param name="to">Upper end, m/s; moved to a whole number of steps.</param>
    /// <param name="step">Width of a cell, m/s.</param>
    public VelocityGrid(double from, double to, double step)
    {
        if (!(from > 0)) throw new ArgumentOutOfRangeException(nameof(from), from, "must be positive");
        if (!(step > 0)) throw new ArgumentOutOfRangeException(nameof(step), step, "must be positive");
        if (!(to > from)) throw new ArgumentOutOfRangeException(nameof(to), to, $"must exceed {from}");
        (From, Step) = (from, step);
        Cells = Math.Max(1, (int)Math.Round((to - from) / step));
    }

    public double From { get; }
    public double Step { get; }
    public int Cells { get; }

    /// <summary>Upper end of the grid, m/s.</summary>
    public double To => Edge(Cells);

    /// <summary>Lower edge of a cell; for cell = Cells the upper end, m/s.</summary>
    public double Edge(int cell) => From + cell * Step;

    /// <summary>Middle of a cell, m/s.</summary>
    public double Centre(int cell) => From + (cell + 0.5) * Step;

    /// <summary>[cells + 1] m/s.</summary>
    public double[] Edges() => [.. Enumerable.Range(0, Cells + 1).Select(Edge)];

    /// <summary>[cells] share of each cell that lies below a speed.</summary>
    public double[] ShareBelow(double speed) =>
        [.. Enumerable.Range(0, Cells).Select(c => Math.Clamp((speed - Edge(c)) / Step, 0, 1))];
}
