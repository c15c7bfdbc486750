namespace Pipeline.Fitting;

/// <summary>One parameter of a family.</summary>
/// <param name="Name">As the report calls it.</param>
/// <param name="Unit">SI; empty where it has none.</param>
/// <param name="Low">Smallest value searched.</param>
/// <param name="High">Largest value searched.</param>
sealed record ShapeCoordinate(string Name, string Unit, double Low, double High);

/// <summary>Velocity spectra with a few parameters, over the cells of one grid. Holds no state between calls: replicas share it.</summary>
interface IShapeFamily
{
    /// <summary>Name in the configuration.</summary>
    string Name { get; }

    /// <summary>In a sentence: "one supersonic beam".</summary>
    string Phrase { get; }

    /// <summary>[p].</summary>
    IReadOnlyList<ShapeCoordinate> Coordinates { get; }

    /// <summary>[rows][p] linear forms with a unit normal prior about zero; empty where the data stand alone.</summary>
    IReadOnlyList<double[]> Priors => [];

    /// <summary>Where to begin, each with one molecule or so.</summary>
    /// <param name="centre">Rough mean velocity, m/s.</param>
    IEnumerable<double[]> Starts(double centre);

    /// <summary>[p] the same shape with so many times the molecules.</summary>
    double[] Scale(double[] x, double factor);

    /// <summary>Molecules of each cell, and their derivatives.</summary>
    /// <param name="x">[p].</param>
    /// <param name="molecules">[cells] to be filled.</param>
    /// <param name="slopes">[p][cells] to be filled.</param>
    void Fill(ReadOnlySpan<double> x, Span<double> molecules, double[][] slopes);

    /// <summary>[p] the same spectrum with its parts in the order of their names.</summary>
    double[] Ordered(double[] x) => x;

    /// <summary>Name of a family that is a case of this one, to be fitted beside it: where it does as well, this one's parameters mean nothing. Null: none.</summary>
    string? Simpler => null;

    /// <summary>The formula with its values.</summary>
    string Describe(double[] x);
}
