namespace Pipeline;

/// <summary>Unusable data or configuration. Caught once a command, and once a run by the night's loop.</summary>
public class DataFaultException(Fault fault) : Exception(fault.ToString())
{
    /// <summary>A fault given by its four parts.</summary>
    public DataFaultException(string where, string found, string expected, string remedy)
        : this(new Fault(where, found, expected, remedy)) { }

    /// <summary>The fault as told to the user.</summary>
    public Fault Fault { get; } = fault;
}
